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

    public Hdf5GroupsSource(string path, Hdf5GroupsLayout layout, DetectorKind kind, Hdf5Access? access = null) : base(path, layout, access)
    {
        _layout = layout;
        Begin(() =>
        {
            _groups = [.. File.Groups("/").Where(g => FileSystemName.MatchesSimpleExpression(layout.Groups, g, ignoreCase: false))];
            if (_groups.Length == 0) throw new DataFaultException(Name, $"no group \"{layout.Groups}\"", "one group a shot", "correct samples.groups in the layout");
            ShotInfo[] shots = ReadShots();
            return (StatedShape.Of(layout.Axis, layout.Meaning, shots.Length, kind) with { LowestCode = layout.LowestCode, HighestCode = layout.HighestCode, Unfilled = _groups.Length - shots.Length }, shots);
        });
    }

    public override IEnumerable<ShotBlock> ReadBlocks()
    {
        for (int k = 0; k < Shape.Shots; k++)
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
        return new ShotTable(Name, c, [.. c.Numeric.Select(a => a is null ? null : _groups.Select(g => File.ReadNumberAttribute(g, a)).ToArray())],
            [.. c.Labels.Select(a => a is null ? null : _groups.Select(g => File.ReadTextAttribute(g, a)).ToArray())]).ToShots(repeats: true);
    }
}
