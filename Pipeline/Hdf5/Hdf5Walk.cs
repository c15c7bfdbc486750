using System.Globalization;
using PureHDF;

namespace Pipeline.Hdf5;

/// <summary>Lists what a file holds. Files with soft links are refused before, so a walk ends.</summary>
static class Hdf5Walk
{
    const int Deepest = 16, LongestText = 1 << 20;

    public static IReadOnlyList<Hdf5Node> From(IH5Group root, int most)
    {
        var nodes = new List<Hdf5Node>();
        Add(root, "", nodes, most, 0);
        return nodes;
    }

    static void Add(IH5Group group, string path, List<Hdf5Node> nodes, int most, int depth)
    {
        if (depth > Deepest) return;
        nodes.Add(new Hdf5Node(path.Length == 0 ? "/" : path, null, ElementKind.Other, "group", Attributes(group)));
        foreach (IH5Object child in group.Children().OrderBy(c => c.Name, StringComparer.Ordinal))
        {
            if (nodes.Count >= most) return;
            string at = path.Length == 0 ? child.Name : $"{path}/{child.Name}";
            if (child is IH5Group below) Add(below, at, nodes, most, depth + 1);
            else if (child is IH5Dataset dataset)
                nodes.Add(new Hdf5Node(at, [.. dataset.Space.Dimensions.Select(d => (long)d)], ManagedHdf5File.KindOf(dataset.Type), Word(dataset.Type), Attributes(dataset))
                {
                    Fields = dataset.Type.Class == H5DataTypeClass.Compound ? [.. dataset.Type.Compound.Members.Select(m => m.Name)] : [],
                });
        }
    }

    internal static string Word(IH5DataType type) => type.Class switch
    {
        H5DataTypeClass.FixedPoint => $"{(type.FixedPoint.IsSigned ? "int" : "uint")}{8 * type.Size}",
        H5DataTypeClass.FloatingPoint => $"float{8 * type.Size}",
        H5DataTypeClass.String or H5DataTypeClass.VariableLength => "text",
        H5DataTypeClass.Compound => $"table of {string.Join(", ", type.Compound.Members.Select(m => m.Name))}",
        H5DataTypeClass.Enumerated => "an enumeration",
        _ => type.Class.ToString(),
    };

    static List<(string, string)> Attributes(IH5Object holder) => [.. holder.Attributes().OrderBy(a => a.Name, StringComparer.Ordinal).Select(a => (a.Name, Text(a)))];

    static string Text(IH5Attribute a)
    {
        try
        {
            // no string of an attribute is that long in a file that is whole
            if (a.Type.Size > LongestText) return "(not shown)";
            if (a.Space.Rank != 0) return $"({Word(a.Type)}, {a.Space.Rank} {(a.Space.Rank == 1 ? "dimension" : "dimensions")})";
            return a.Type.Class switch
            {
                H5DataTypeClass.String or H5DataTypeClass.VariableLength => a.Read<string>(),
                H5DataTypeClass.Enumerated => ManagedValues.NameOf(a.Type, ManagedValues.Whole(a.Type.Enumeration.BaseType, new(a))[0]),
                _ => ManagedValues.Numbers(a.Type, new(a)) is { } numbers ? numbers[0].ToString("R", CultureInfo.InvariantCulture) : Word(a.Type),
            };
        }
        catch (Exception)
        {
            return "(not shown)"; // an array or an unusual type: a walk shows what it can
        }
    }
}
