using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using static Pipeline.Hdf5.Library.Declarations;

namespace Pipeline.Hdf5.Library;

/// <summary>LZF as a filter of the C library, which does not bring it.</summary>
static unsafe class LzfFilter
{
    public static void Register()
    {
        // the library keeps the name's address, so it is never freed
        byte* name = (byte*)NativeMemory.Alloc(4);
        (name[0], name[1], name[2], name[3]) = ((byte)'l', (byte)'z', (byte)'f', 0);
        FilterClass filter = new() { Version = 1, Id = Lzf.FilterId, Encodes = 0, Decodes = 1, Name = name, Filter = &Filter };
        _ = H5Zregister(&filter);
    }

    /// <summary>Returns the length of the data, or 0 for a failure.</summary>
    [UnmanagedCallersOnly(CallConvs = [typeof(CallConvCdecl)])]
    static nuint Filter(uint flags, nuint parameters, uint* values, nuint bytes, nuint* bufferSize, void** buffer)
    {
        const uint Reverse = 0x100;
        // the third value is the size of a chunk
        if ((flags & Reverse) == 0 || parameters < 3 || values[2] is 0 or > int.MaxValue || bytes > int.MaxValue) return 0;
        int size = (int)values[2];
        byte* plain = (byte*)H5allocate_memory((nuint)size, 0);
        if (plain is null) return 0;
        if (!Lzf.TryDecode(new ReadOnlySpan<byte>(*buffer, (int)bytes), new Span<byte>(plain, size)))
        {
            _ = H5free_memory(plain);
            return 0;
        }
        _ = H5free_memory(*buffer);
        *buffer = plain;
        *bufferSize = (nuint)size;
        return (nuint)size;
    }
}
