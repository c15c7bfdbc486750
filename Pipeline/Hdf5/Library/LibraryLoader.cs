using System.Globalization;
using System.Reflection;
using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using static Pipeline.Hdf5.Library.Declarations;

namespace Pipeline.Hdf5.Library;

/// <summary>Finds the HDF5 C library of the machine, once.</summary>
static unsafe class LibraryLoader
{
    static readonly string[] Names =
    [
        "libhdf5_serial.so.103", "libhdf5.so.103", "libhdf5_serial.so.310", "libhdf5.so.310", "libhdf5.so.200", "libhdf5_serial.so.200", "libhdf5_serial.so", "libhdf5.so",
        "libhdf5.dylib", "hdf5.dll",
    ];

    static readonly Lazy<LoadedLibrary?> Found = new(Load);

    /// <summary>One call at a time: builds of the library need not be thread-safe.</summary>
    public static Lock Gate { get; } = new();

    /// <summary>Null where the machine has no HDF5 library of version 1.10 or later.</summary>
    public static LoadedLibrary? Current => Found.Value;

    static LoadedLibrary? Load()
    {
        nint handle = 0;
        if (!Names.Any(name => NativeLibrary.TryLoad(name, out handle))) return null;
        NativeLibrary.SetDllImportResolver(typeof(LibraryLoader).Assembly, (name, _, _) => name == Name ? handle : 0);
        if (H5open() < 0 || H5get_libversion(out uint major, out uint minor, out uint release) < 0 || major < 1 || (major == 1 && minor < 10)) return null;
        // failures are asked for, never printed
        _ = H5Eset_auto2(0, 0, 0);
        LzfFilter.Register();
        long Type(string symbol) => *(long*)NativeLibrary.GetExport(handle, symbol);
        // from 1.12 on the plain name is only a macro
        nint linkInfo = NativeLibrary.TryGetExport(handle, "H5Lget_info1", out nint one) ? one : NativeLibrary.GetExport(handle, "H5Lget_info");
        return new LoadedLibrary(string.Create(CultureInfo.InvariantCulture, $"HDF5 library {major}.{minor}.{release}"), Type("H5T_NATIVE_INT32_g"), Type("H5T_NATIVE_INT64_g"),
            Type("H5T_NATIVE_UINT64_g"), Type("H5T_NATIVE_DOUBLE_g"), linkInfo);
    }

    /// <summary>What the library says of its last failure, the innermost cause; the record is cleared.</summary>
    public static string LastError()
    {
        string? cause = null;
        _ = H5Ewalk2(0, 1, &Visit, Unsafe.AsPointer(ref cause));
        _ = H5Eclear2(0);
        return cause ?? "no reason given";
    }

    [UnmanagedCallersOnly(CallConvs = [typeof(CallConvCdecl)])]
    static int Visit(uint n, ErrorRecord* record, void* data)
    {
        // downward: the last visit is the innermost call
        Unsafe.AsRef<string?>(data) = Marshal.PtrToStringUTF8((nint)record->Description);
        return 0;
    }
}

/// <summary>The library with its types of memory.</summary>
/// <param name="Version">"HDF5 library 1.10.8".</param>
/// <param name="Int32">Type of memory.</param>
/// <param name="Int64">Type of memory.</param>
/// <param name="UInt64">Type of memory.</param>
/// <param name="Double">Type of memory.</param>
/// <param name="LinkInfoFunction">H5Lget_info.</param>
sealed unsafe record LoadedLibrary(string Version, long Int32, long Int64, long UInt64, long Double, nint LinkInfoFunction)
{
    /// <summary>What a link is: 0 hard, 1 soft, 64 external.</summary>
    public LinkInfo? Link(long location, string name)
    {
        LinkInfo info;
        fixed (byte* text = System.Text.Encoding.UTF8.GetBytes(name + "\0"))
            return ((delegate* unmanaged[Cdecl]<long, byte*, LinkInfo*, long, int>)LinkInfoFunction)(location, text, &info, 0) < 0 ? null : info;
    }
}
