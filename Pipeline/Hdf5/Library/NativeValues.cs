using System.Globalization;
using System.Runtime.InteropServices;
using System.Text;
using static Pipeline.Hdf5.Library.Declarations;

namespace Pipeline.Hdf5.Library;

/// <summary>Types of elements, and values in the types of memory that the readers want. The library converts.</summary>
static unsafe class NativeValues
{
    /// <summary>H5T_class_t.</summary>
    const int Integer = 0, Real = 1, String = 3, BitField = 4, Compound = 6, Enumeration = 8;

    public static ElementKind KindOf(long type) => H5Tget_class(type) switch
    {
        Integer => ElementKind.Integer,
        Real => ElementKind.Real,
        String or Enumeration => ElementKind.Text,
        Compound => ElementKind.Table,
        _ => ElementKind.Other,
    };

    /// <summary>As a word, "int16".</summary>
    public static string Word(long type) => H5Tget_class(type) switch
    {
        Integer => string.Create(CultureInfo.InvariantCulture, $"{(H5Tget_sign(type) == 0 ? "uint" : "int")}{8 * H5Tget_size(type)}{(IsBig(type) ? ", big-endian" : "")}"),
        Real => string.Create(CultureInfo.InvariantCulture, $"float{8 * H5Tget_size(type)}{(IsBig(type) ? ", big-endian" : "")}"),
        String => "text",
        Enumeration => $"one of {string.Join(", ", Members(type))}",
        Compound => $"table of {string.Join(", ", Members(type))}",
        BitField => "bits",
        _ => "another type",
    };

    /// <summary>Names of the fields of a compound, or of the values of an enumeration.</summary>
    public static IReadOnlyList<string> Members(long type)
    {
        int count = LibraryFailure.Check(H5Tget_nmembers(type));
        var names = new string[count];
        for (uint k = 0; k < count; k++)
        {
            byte* name = H5Tget_member_name(type, k);
            names[k] = Marshal.PtrToStringUTF8((nint)name) ?? "";
            _ = H5free_memory(name);
        }
        return names;
    }

    /// <summary>Whether integers of this type fit into 32 bits with sign; others are read wide and looked at.</summary>
    public static bool FitsInt32(long type) => H5Tget_size(type) < 4 || (H5Tget_size(type) == 4 && H5Tget_sign(type) != 0);

    public static bool IsUnsigned(long type) => H5Tget_sign(type) == 0;

    /// <summary>Numbers by the given read call, which fills a buffer of a type of memory.</summary>
    public static double[] Numbers(LoadedLibrary library, long type, string? field, long count, Action<long, nint> read)
    {
        var values = new double[count];
        using NativeId? wrapped = field is null ? null : Wrap(field, library.Double, sizeof(double));
        if (count > 0) fixed (double* at = values) read(wrapped?.Value ?? library.Double, (nint)at);
        return values;
    }

    /// <summary>Labels: strings, names of an enumeration, or numbers as invariant text.</summary>
    public static string[] Labels(LoadedLibrary library, long type, string? field, long count, Action<long, nint> read) => H5Tget_class(type) switch
    {
        // one wrong reference and the library ends the process: CheckedHdf5File reads these by the other library
        String when LibraryFailure.Check(H5Tis_variable_str(type)) > 0 => throw new LibraryFailure("strings of variable length; write them with a fixed length"),
        String => Fixed(type, field, count, read),
        Enumeration => Names(type, field, count, read),
        Integer or Real => [.. Numbers(library, type, field, count, read).Select(v => v.ToString(CultureInfo.InvariantCulture))],
        _ => throw new LibraryFailure($"labels of type \"{Word(type)}\""),
    };

    static string[] Fixed(long type, string? field, long count, Action<long, nint> read)
    {
        using NativeId memory = NativeId.Type(H5Tcopy(type));
        int size = (int)H5Tget_size(type);
        byte[] bytes = Bytes(memory, field, size, count, read);
        Encoding encoding = H5Tget_cset(type) == 1 ? Encoding.UTF8 : Encoding.Latin1;
        return [.. Enumerable.Range(0, (int)count).Select(k => Trimmed(encoding.GetString(bytes, k * size, size)))];
    }

    /// <summary>A padded string ends at its first null.</summary>
    static string Trimmed(string text)
    {
        int end = text.IndexOf('\0', StringComparison.Ordinal);
        return (end < 0 ? text : text[..end]).TrimEnd(' ');
    }

    static string[] Names(long type, string? field, long count, Action<long, nint> read)
    {
        using NativeId memory = NativeId.Type(H5Tget_native_type(type, 0));
        int size = (int)H5Tget_size(memory);
        IReadOnlyList<string> names = Members(memory);
        var byValue = new Dictionary<long, string>();
        byte[] one = new byte[Math.Max(size, 8)];
        for (uint k = 0; k < names.Count; k++)
        {
            fixed (byte* at = one) LibraryFailure.Check(H5Tget_member_value(memory, k, at));
            byValue[Whole(one, size)] = names[(int)k];
        }
        byte[] bytes = Bytes(memory, field, size, count, read);
        return [.. Enumerable.Range(0, (int)count).Select(k => Whole(bytes.AsSpan(k * size), size) is var value && byValue.TryGetValue(value, out string? label)
            ? label : Whole(bytes.AsSpan(k * size), size).ToString(CultureInfo.InvariantCulture))];
    }

    static long Whole(ReadOnlySpan<byte> bytes, int size) => size switch
    {
        1 => (sbyte)bytes[0],
        2 => MemoryMarshal.Read<short>(bytes),
        4 => MemoryMarshal.Read<int>(bytes),
        _ => MemoryMarshal.Read<long>(bytes),
    };

    static byte[] Bytes(long memory, string? field, int size, long count, Action<long, nint> read)
    {
        byte[] bytes = new byte[size * count];
        using NativeId? wrapped = field is null ? null : Wrap(field, memory, (nuint)size);
        if (bytes.Length > 0) fixed (byte* at = bytes) read(wrapped?.Value ?? memory, (nint)at);
        return bytes;
    }

    /// <summary>A compound in memory that holds one field of the one in the file.</summary>
    static NativeId Wrap(string field, long member, nuint size)
    {
        NativeId wrapped = NativeId.Type(H5Tcreate(Compound, size));
        LibraryFailure.Check(H5Tinsert(wrapped, field, 0, member));
        return wrapped;
    }

    static bool IsBig(long type) => H5Tget_order(type) == 1;
}
