package android.content;

import java.util.Map;
import java.util.TreeMap;

/** The overloads of put() are those of the platform: a primitive number fits none of them. */
public class ContentValues {
    public final Map<String, Object> values = new TreeMap<>();

    public void put(String key, String value) { values.put(key, value); }
    public void put(String key, Byte value) { values.put(key, value); }
    public void put(String key, Short value) { values.put(key, value); }
    public void put(String key, Integer value) { values.put(key, value); }
    public void put(String key, Long value) { values.put(key, value); }
    public void put(String key, Float value) { values.put(key, value); }
    public void put(String key, Double value) { values.put(key, value); }
    public void put(String key, Boolean value) { values.put(key, value); }
    public void put(String key, byte[] value) { values.put(key, value); }

    public void clear() { values.clear(); }
}
