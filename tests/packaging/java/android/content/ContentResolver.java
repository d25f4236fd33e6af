package android.content;

import android.database.Cursor;
import android.net.Uri;
import android.os.ParcelFileDescriptor;
import java.io.File;
import java.io.RandomAccessFile;
import java.util.ArrayList;
import java.util.List;
import java.util.Map;

/** A store with one entry at a time, kept below the folder named by the property "store". It fails where told to. */
public class ContentResolver {
    public static final List<String> log = new ArrayList<>();
    public static String failsAt = "";
    public static Map<String, Object> entry = null;

    private static File file() {
        return new File(System.getProperty("store"), "entry.bin");
    }

    private static boolean fails(String where) {
        return failsAt.equals(where);
    }

    public Uri insert(Uri collection, ContentValues values) {
        log.add("insert");
        if (fails("insert")) return null;
        entry = new java.util.TreeMap<>(values.values);
        return new Uri(collection + "/7");
    }

    public ParcelFileDescriptor openFileDescriptor(Uri uri, String mode) throws Exception {
        log.add("open " + mode);
        if (fails("open")) throw new java.io.FileNotFoundException("no space left");
        if (fails("open nothing")) return null;
        return new ParcelFileDescriptor(new RandomAccessFile(fails("write") ? new File("/dev/full") : file(), "rw"));
    }

    public int update(Uri uri, ContentValues values, String where, String[] with) {
        log.add("update");
        if (fails("update")) return 0;
        entry.putAll(values.values);
        return 1;
    }

    public int delete(Uri uri, String where, String[] with) {
        log.add("delete");
        entry = null;
        file().delete();
        return 1;
    }

    public Cursor query(Uri uri, String[] columns, String where, String[] with, String order) {
        log.add("query");
        if (fails("query")) throw new SecurityException("not yours");
        return new Cursor(entry.get(columns[0]).toString().replace(".zip", " (1).zip"));
    }
}
