using System.Globalization;
using System.IO.Enumeration;
using Pipeline.Apparatus;
using Pipeline.Hdf5;
using Pipeline.Reduction;

namespace Pipeline.Ingest;

/// <summary>One HDF5 group a shot, housekeeping as attributes.</summary>
sealed class Hdf5GroupsSource : Hdf5ShotSource
{
    readonly Hdf5GroupsLayout _layout;
    string[] _groups = [];

    public Hdf5GroupsSource(string path, Hdf5GroupsLayout layout, DetectorKind kind) : base(path)
    {
        _layout = layout;
        Begin(() =>
        {
            _groups = [.. File.Groups("/").Where(g => FileSystemName.MatchesSimpleExpression(layout.Groups, g, ignoreCase: false))];
            if (_groups.Length == 0) throw new DataFaultException(Name, $"no group \"{layout.Groups}\"", "one group a shot", "correct samples.groups in the layout");
            return (StatedShape.Of(layout.Axis, layout.Meaning, _groups.Length, kind) with { LowestCode = layout.LowestCode, HighestCode = layout.HighestCode }, ReadShots());
        });
    }

    public override IEnumerable<ShotBlock> ReadBlocks()
    {
        for (int k = 0; k < _groups.Length; k++)
        {
            string path = $"{_groups[k]}/{_layout.Samples}";
            DatasetShape shape = File.Shape(path);
            if (shape.Dimensions.Count != 1 || shape.Dimensions[0] != Shape.Samples)
                throw new DataFaultException($"{Name}, {path}", $"shape [{string.Join(", ", shape.Dimensions)}]", $"[{Shape.Samples}], as the layout states", "correct samples.samples in the layout, or record the shot again");
            yield return shape.Elements == ElementKind.Integer
                ? new ShotBlock(k, ShotsFrom(k, 1), File.ReadIntegers(path, 0, Shape.Samples)) : new ShotBlock(k, ShotsFrom(k, 1), Finite(path, File.ReadReals(path, 0, Shape.Samples)));
        }
    }

    double[] Finite(string path, double[] values)
    {
        int bad = Array.FindIndex(values, v => !double.IsFinite(v));
        return bad < 0 ? values : throw new DataFaultException($"{Name}, {path}, sample {bad}", values[bad].ToString(CultureInfo.InvariantCulture), "a finite number", "record the shot again");
    }

    ShotInfo[] ReadShots()
    {
        ShotColumns c = _layout.Shots;
        double[]? Numbers(string? attribute) => attribute is null ? null : [.. _groups.Select(g => File.ReadNumberAttribute(g, attribute))];
        string[] Labels(string attribute) => [.. _groups.Select(g => File.ReadTextAttribute(g, attribute))];
        return new ShotTable(Numbers(c.Number), Labels(c.Kind), c.Condition is { } condition ? Labels(condition) : null, Numbers(c.ProbeMonitor),
            Numbers(c.AblationMonitor), Numbers(c.Detuning)).ToShots(Name, c);
    }
}
