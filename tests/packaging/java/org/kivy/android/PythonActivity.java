package org.kivy.android;

import android.content.ContentResolver;

public class PythonActivity {
    public static PythonActivity mActivity = new PythonActivity();

    public ContentResolver getContentResolver() {
        return new ContentResolver();
    }

    public java.io.File[] getExternalFilesDirs(String kind) {
        String own = System.getProperty("own");
        return new java.io.File[] {own == null ? null : new java.io.File(own), null};
    }
}
