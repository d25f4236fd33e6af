package android.os;

import java.io.FileDescriptor;
import java.io.RandomAccessFile;
import java.util.ArrayList;
import java.util.List;

public class ParcelFileDescriptor {
    private static final List<RandomAccessFile> detached = new ArrayList<>();
    private final RandomAccessFile file;

    public ParcelFileDescriptor(RandomAccessFile file) {
        this.file = file;
    }

    public int detachFd() throws Exception {
        detached.add(file);
        java.lang.reflect.Field number = FileDescriptor.class.getDeclaredField("fd");
        number.setAccessible(true);
        return number.getInt(file.getFD());
    }
}
