using System.Runtime.InteropServices;

namespace Pipeline.Hdf5.Library;

/// <summary>Declarations over the HDF5 C library, versions 1.10 and later; names and meaning as in the HDF5 Reference Manual. hid_t is a
/// signed, hsize_t an unsigned number of 64 bits; a negative result is a failure.</summary>
static unsafe partial class Declarations
{
    /// <summary>The name that <see cref="LibraryLoader"/> resolves.</summary>
    public const string Name = "hdf5";

    [LibraryImport(Name)] public static partial int H5open();
    [LibraryImport(Name)] public static partial int H5get_libversion(out uint major, out uint minor, out uint release);
    [LibraryImport(Name)] public static partial void* H5allocate_memory(nuint size, byte clear);
    [LibraryImport(Name)] public static partial int H5free_memory(void* memory);

    [LibraryImport(Name)] public static partial int H5Eset_auto2(long stack, nint function, nint data);
    [LibraryImport(Name)] public static partial int H5Eclear2(long stack);
    [LibraryImport(Name)] public static partial int H5Ewalk2(long stack, int direction, delegate* unmanaged[Cdecl]<uint, ErrorRecord*, void*, int> visit, void* data);

    [LibraryImport(Name, StringMarshalling = StringMarshalling.Utf8)] public static partial long H5Fopen(string name, uint flags, long access);
    [LibraryImport(Name)] public static partial int H5Fclose(long file);

    [LibraryImport(Name, StringMarshalling = StringMarshalling.Utf8)] public static partial long H5Oopen(long location, string name, long access);
    [LibraryImport(Name)] public static partial int H5Oclose(long thing);
    [LibraryImport(Name)] public static partial int H5Iget_type(long thing);
    [LibraryImport(Name)] public static partial int H5Gget_info(long group, out GroupInfo info);
    [LibraryImport(Name, StringMarshalling = StringMarshalling.Utf8)] public static partial int H5Lexists(long location, string name, long access);
    [LibraryImport(Name, StringMarshalling = StringMarshalling.Utf8)] public static partial int H5Lget_val(long location, string name, byte* value, nuint size, long access);
    [LibraryImport(Name, StringMarshalling = StringMarshalling.Utf8)]
    public static partial nint H5Lget_name_by_idx(long location, string group, int index, int order, ulong n, byte* name, nuint size, long access);

    [LibraryImport(Name)] public static partial long H5Dget_space(long dataset);
    [LibraryImport(Name)] public static partial long H5Dget_type(long dataset);
    [LibraryImport(Name)] public static partial long H5Dget_create_plist(long dataset);
    [LibraryImport(Name)] public static partial ulong H5Dget_storage_size(long dataset);
    [LibraryImport(Name)] public static partial int H5Dread(long dataset, long memoryType, long memorySpace, long fileSpace, long transfer, void* buffer);

    [LibraryImport(Name)] public static partial int H5Pclose(long list);
    [LibraryImport(Name)] public static partial int H5Pget_layout(long list);
    [LibraryImport(Name)] public static partial int H5Pget_chunk(long list, int most, ulong* dimensions);
    [LibraryImport(Name)] public static partial int H5Pget_external_count(long list);

    [LibraryImport(Name)] public static partial int H5Sget_simple_extent_ndims(long space);
    [LibraryImport(Name)] public static partial int H5Sget_simple_extent_type(long space);
    [LibraryImport(Name)] public static partial int H5Sget_simple_extent_dims(long space, ulong* dimensions, ulong* largest);
    [LibraryImport(Name)] public static partial int H5Sselect_hyperslab(long space, int operation, ulong* start, ulong* stride, ulong* count, ulong* block);
    [LibraryImport(Name)] public static partial long H5Screate_simple(int rank, ulong* dimensions, ulong* largest);
    [LibraryImport(Name)] public static partial int H5Sclose(long space);

    [LibraryImport(Name)] public static partial int H5Tget_class(long type);
    [LibraryImport(Name)] public static partial nuint H5Tget_size(long type);
    [LibraryImport(Name)] public static partial int H5Tget_sign(long type);
    [LibraryImport(Name)] public static partial int H5Tget_order(long type);
    [LibraryImport(Name)] public static partial int H5Tget_cset(long type);
    [LibraryImport(Name)] public static partial int H5Tis_variable_str(long type);
    [LibraryImport(Name)] public static partial int H5Tget_nmembers(long type);
    [LibraryImport(Name)] public static partial byte* H5Tget_member_name(long type, uint member);
    [LibraryImport(Name)] public static partial long H5Tget_member_type(long type, uint member);
    [LibraryImport(Name)] public static partial int H5Tget_member_value(long type, uint member, void* value);
    [LibraryImport(Name, StringMarshalling = StringMarshalling.Utf8)] public static partial int H5Tget_member_index(long type, string name);
    [LibraryImport(Name)] public static partial long H5Tget_native_type(long type, int direction);
    [LibraryImport(Name)] public static partial long H5Tcreate(int kind, nuint size);
    [LibraryImport(Name, StringMarshalling = StringMarshalling.Utf8)] public static partial int H5Tinsert(long type, string name, nuint offset, long member);
    [LibraryImport(Name)] public static partial long H5Tcopy(long type);
    [LibraryImport(Name)] public static partial int H5Tclose(long type);

    [LibraryImport(Name, StringMarshalling = StringMarshalling.Utf8)] public static partial int H5Aexists(long thing, string name);
    [LibraryImport(Name, StringMarshalling = StringMarshalling.Utf8)] public static partial long H5Aopen(long thing, string name, long access);
    [LibraryImport(Name)] public static partial long H5Aget_type(long attribute);
    [LibraryImport(Name)] public static partial long H5Aget_space(long attribute);
    [LibraryImport(Name)] public static partial int H5Aread(long attribute, long memoryType, void* buffer);
    [LibraryImport(Name)] public static partial int H5Aclose(long attribute);
    [LibraryImport(Name, StringMarshalling = StringMarshalling.Utf8)]
    public static partial nint H5Aget_name_by_idx(long location, string thing, int index, int order, ulong n, byte* name, nuint size, long access);

    [LibraryImport(Name)] public static partial int H5Zregister(FilterClass* filter);

    /// <summary>H5E_error2_t.</summary>
    [StructLayout(LayoutKind.Sequential)]
    public struct ErrorRecord
    {
        public long Class, Major, Minor;
        public uint Line;
        public byte* Function, File, Description;
    }

    /// <summary>H5G_info_t.</summary>
    [StructLayout(LayoutKind.Sequential)]
    public struct GroupInfo
    {
        public int Storage;
        public ulong Links;
        public long LargestOrder;
        public byte Mounted;
    }

    /// <summary>H5L_info_t of 1.10, H5L_info1_t later.</summary>
    [StructLayout(LayoutKind.Sequential)]
    public struct LinkInfo
    {
        public int Type;
        public byte OrderValid;
        public long Order;
        public int Characters;
        public ulong AddressOrSize;
    }

    /// <summary>H5Z_class2_t.</summary>
    [StructLayout(LayoutKind.Sequential)]
    public struct FilterClass
    {
        public int Version, Id;
        public uint Encodes, Decodes;
        public byte* Name;
        public nint CanApply, SetLocal;
        public delegate* unmanaged[Cdecl]<uint, nuint, uint*, nuint, nuint*, void**, nuint> Filter;
    }
}
