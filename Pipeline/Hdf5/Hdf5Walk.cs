using System.Globalization;
using PureHDF;

namespace Pipeline.Hdf5;

/// <summary>Lists what a file holds. Files with soft links are refused before, so a walk ends.</summary>
static class Hdf5Walk
{
    const int Deepest = 16;

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
                nodes.Add(new Hdf5Node(at, [.. dataset.Space.Dimensions.Select(d => (long)d)], ManagedHdf5File.KindOf(dataset.Type), Word(dataset.Type), Attributes(dataset)));
        }
    }

    static string Word(IH5DataType type) => type.Class switch
    {
        H5DataTypeClass.FixedPoint => $"{(type.FixedPoint.IsSigned ? "int" : "uint")}{8 * type.Size}",
        H5DataTypeClass.FloatingPoint => $"float{8 * type.Size}",
        H5DataTypeClass.String or H5DataTypeClass.VariableLength => "text",
        _ => type.Class.ToString(),
    };

    static List<(string, string)> Attributes(IH5Object holder) => [.. holder.Attributes().OrderBy(a => a.Name, StringComparer.Ordinal).Select(a => (a.Name, Text(a)))];

    static string Text(IH5Attribute a)
    {
        try
        {
            return (a.Type.Class, a.Type.Size) switch
            {
                (H5DataTypeClass.String or H5DataTypeClass.VariableLength, _) => a.Read<string>(),
                (H5DataTypeClass.FloatingPoint, 8) => a.Read<double>().ToString("R", CultureInfo.InvariantCulture),
                (H5DataTypeClass.FloatingPoint, 4) => a.Read<float>().ToString("R", CultureInfo.InvariantCulture),
                (H5DataTypeClass.FixedPoint, 8) => a.Read<long>().ToString(CultureInfo.InvariantCulture),
                (H5DataTypeClass.FixedPoint, 4) => a.Read<int>().ToString(CultureInfo.InvariantCulture),
                _ => Word(a.Type),
            };
        }
        catch (Exception)
        {
            return "(not shown)"; // an array or an unusual type: a walk shows what it can
        }
    }
}
