package android.net;

public class Uri {
    private final String text;

    public Uri(String text) {
        this.text = text;
    }

    public String toString() {
        return text;
    }
}
