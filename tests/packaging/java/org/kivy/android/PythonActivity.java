package org.kivy.android;

import android.content.ContentResolver;

public class PythonActivity {
    public static PythonActivity mActivity = new PythonActivity();

    public ContentResolver getContentResolver() {
        return new ContentResolver();
    }
}
