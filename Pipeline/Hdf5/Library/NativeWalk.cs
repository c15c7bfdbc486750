using System.Globalization;
using System.Text;
using static Pipeline.Hdf5.Library.Declarations;

namespace Pipeline.Hdf5.Library;

/// <summary>Lists what a file holds. Links that lead nowhere, in circles or out of the file are listed and not followed.</summary>
sealed unsafe class NativeWalk(LoadedLibrary library, NativeLinks links)
{
    const int Deepest = 16;
    readonly List<Hdf5Node> _nodes = [];

    public IReadOnlyList<Hdf5Node> From(int most)
    {
        Add("", most, 0);
        return _nodes;
    }

    void Add(string path, int most, int depth)
    {
        NativeId? thing = null;
        string broken = "link to nothing";
        try { thing = links.Open(path); }
        catch (DataFaultException e) { broken = e.Fault.Found; }
        using NativeId? close = thing;
        if (thing is null) _nodes.Add(new Hdf5Node(path, null, ElementKind.Other, broken, []));
        else if (H5Iget_type(thing) == NativeLinks.GroupType) AddGroup(thing, path, most, depth);
        else if (H5Iget_type(thing) == NativeLinks.DatasetType) AddDataset(thing, path);
    }

    void AddGroup(NativeId group, string path, int most, int depth)
    {
        _nodes.Add(new Hdf5Node(path.Length == 0 ? "/" : path, null, ElementKind.Other, "group", Attributes(group)));
        if (depth >= Deepest) return;
        foreach (string name in NativeLinks.Names(group))
        {
            if (_nodes.Count >= most) return;
            Add(path.Length == 0 ? name : $"{path}/{name}", most, depth + 1);
        }
    }

    void AddDataset(NativeId dataset, string path)
    {
        using NativeId type = NativeId.Type(H5Dget_type(dataset));
        ElementKind kind = NativeValues.KindOf(type);
        _nodes.Add(new Hdf5Node(path, [.. NativeHdf5File.Dimensions(dataset).Select(d => (long)d)], kind, NativeValues.Word(type), Attributes(dataset))
        {
            Fields = kind == ElementKind.Table ? NativeValues.Members(type) : [],
        });
    }

    List<(string, string)> Attributes(NativeId holder)
    {
        const int Most = 64;
        var found = new List<(string, string)>();
        byte[] text = new byte[512];
        for (ulong n = 0; n < Most; n++)
        {
            nint length;
            fixed (byte* at = text) length = H5Aget_name_by_idx(holder, ".", 0, 0, n, at, (nuint)text.Length, 0);
            if (length < 0) break;
            string name = Encoding.UTF8.GetString(text, 0, (int)Math.Min(length, text.Length - 1));
            found.Add((name, Text(holder, name)));
        }
        _ = H5Eclear2(0);
        return found;
    }

    string Text(NativeId holder, string name)
    {
        try
        {
            using var attribute = new NativeId(H5Aopen(holder, name, 0), H5Aclose);
            using NativeId type = NativeId.Type(H5Aget_type(attribute)), space = NativeId.Space(H5Aget_space(attribute));
            int rank = H5Sget_simple_extent_ndims(space);
            if (rank != 0) return string.Create(CultureInfo.InvariantCulture, $"({NativeValues.Word(type)}, {rank} {(rank == 1 ? "dimension" : "dimensions")})");
            return NativeValues.Labels(library, type, null, 1, (memory, at) => LibraryFailure.Check(H5Aread(attribute, memory, (void*)at)))[0];
        }
        catch (LibraryFailure)
        {
            return "(not shown)"; // an unusual type: a walk shows what it can
        }
    }
}
