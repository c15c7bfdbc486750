using System.Globalization;
using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using PureHDF;
using PureHDF.Filters;
using PureHDF.Selections;

namespace Pipeline.Hdf5;

/// <summary>A dataset, or part of one, or an attribute, whose elements are to be read at once.</summary>
readonly struct ManagedHolder
{
    readonly IH5Dataset? _dataset;
    readonly IH5Attribute? _attribute;

    readonly Selection? _part;

    public ManagedHolder(IH5Dataset dataset, Selection? part = null) => (_dataset, _part) = (dataset, part);

    public ManagedHolder(IH5Attribute attribute) => _attribute = attribute;

    bool IsScalar => (_dataset?.Space ?? _attribute!.Space).Rank == 0;

    /// <summary>The library takes no other order of bytes than the machine's, and says so; then bytes are read and turned.</summary>
    public T[] Read<T>() where T : unmanaged
    {
        try { return IsScalar ? [One<T>()] : Many<T>(); }
        catch (Exception e) when (_dataset is not null && IsByteOrder(e))
        {
            byte[] bytes = Many<byte>();
            int size = Unsafe.SizeOf<T>();
            for (int k = 0; k < bytes.Length; k += size) bytes.AsSpan(k, size).Reverse();
            return MemoryMarshal.Cast<byte, T>(bytes).ToArray();
        }
    }

    /// <summary>Of attributes the library gives not even the bytes.</summary>
    public static bool IsByteOrder(Exception e) => e.Message.StartsWith("Byte order", StringComparison.Ordinal);

    T One<T>() => _dataset is null ? _attribute!.Read<T>() : _dataset.Read<T>();

    T[] Many<T>() => _dataset is null ? _attribute!.Read<T[]>() : _dataset.Read<T[]>(_part!);
}

/// <summary>Numbers and names by the managed library. The type that is asked for is always the type of the file: the library takes any
/// other of the same size without a word.</summary>
static class ManagedValues
{
    /// <summary>Null where the elements are no numbers.</summary>
    public static double[]? Numbers(IH5DataType type, ManagedHolder holder) => (type.Class, type.Size) switch
    {
        (H5DataTypeClass.FloatingPoint, 8) => holder.Read<double>(),
        (H5DataTypeClass.FloatingPoint, 4) => Array.ConvertAll(holder.Read<float>(), v => (double)v),
        (H5DataTypeClass.FloatingPoint, 2) => Array.ConvertAll(holder.Read<Half>(), v => (double)v),
        (H5DataTypeClass.FixedPoint, 8) when !type.FixedPoint.IsSigned => Array.ConvertAll(holder.Read<ulong>(), v => (double)v),
        (H5DataTypeClass.FixedPoint, _) => Array.ConvertAll(Whole(type, holder), v => (double)v),
        _ => null,
    };

    /// <summary>Integers of any size.</summary>
    public static long[] Whole(IH5DataType type, ManagedHolder holder) => (type.Size, type.FixedPoint.IsSigned) switch
    {
        (1, true) => Array.ConvertAll(holder.Read<sbyte>(), v => (long)v),
        (1, false) => Array.ConvertAll(holder.Read<byte>(), v => (long)v),
        (2, true) => Array.ConvertAll(holder.Read<short>(), v => (long)v),
        (2, false) => Array.ConvertAll(holder.Read<ushort>(), v => (long)v),
        (4, true) => Array.ConvertAll(holder.Read<int>(), v => (long)v),
        (4, false) => Array.ConvertAll(holder.Read<uint>(), v => (long)v),
        _ => holder.Read<long>(),
    };

    /// <summary>Name of a value of an enumeration; the value itself where it has none.</summary>
    public static string NameOf(IH5DataType type, long value)
    {
        IH5DataType held = type.Enumeration.BaseType;
        IEnumerable<(string Name, long Value)> members = (held.Size, held.FixedPoint.IsSigned) switch
        {
            (1, true) => type.Enumeration.GetMembers<sbyte>().Select(m => (m.Key, (long)m.Value)),
            (1, false) => type.Enumeration.GetMembers<byte>().Select(m => (m.Key, (long)m.Value)),
            (2, true) => type.Enumeration.GetMembers<short>().Select(m => (m.Key, (long)m.Value)),
            (2, false) => type.Enumeration.GetMembers<ushort>().Select(m => (m.Key, (long)m.Value)),
            (4, true) => type.Enumeration.GetMembers<int>().Select(m => (m.Key, (long)m.Value)),
            (4, false) => type.Enumeration.GetMembers<uint>().Select(m => (m.Key, (long)m.Value)),
            _ => type.Enumeration.GetMembers<long>().Select(m => (m.Key, m.Value)),
        };
        return members.FirstOrDefault(m => m.Value == value).Name ?? value.ToString(CultureInfo.InvariantCulture);
    }
}

/// <summary>LZF as a filter of the managed library.</summary>
sealed class ManagedLzf : IH5Filter
{
    public ushort FilterId => Lzf.FilterId;
    public string Name => "lzf";

    public Memory<byte> Filter(FilterInfo info)
    {
        byte[] plain = new byte[info.Parameters is [_, _, var size, ..] && size <= int.MaxValue ? (int)size : info.ChunkSize];
        return Lzf.TryDecode(info.Buffer.Span, plain) ? plain : throw new InvalidDataException("a damaged LZF stream");
    }

    public uint[] GetParameters(uint[] chunkDimensions, uint typeSize, Dictionary<string, object>? options) => throw new NotSupportedException("LZF is read, not written");
}
