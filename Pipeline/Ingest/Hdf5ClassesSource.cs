using System.Globalization;
using System.Text.RegularExpressions;
using Pipeline.Apparatus;
using Pipeline.Hdf5;
using Pipeline.Quantities;
using Pipeline.Reduction;

namespace Pipeline.Ingest;

/// <summary>One HDF5 group a kind and condition, samples [point, repeat, sample]; a record of NaN is a shot that was not taken.</summary>
sealed class Hdf5ClassesSource : Hdf5ShotSource
{
    readonly Hdf5ClassesLayout _layout;
    readonly List<(string Group, ShotInfo[] Shots)> _classes = [];

    public Hdf5ClassesSource(string path, Hdf5ClassesLayout layout, DetectorKind kind, Hdf5Access? access = null) : base(path, layout, access)
    {
        _layout = layout;
        Begin(() =>
        {
            double[] times = File.ReadNumbers(layout.Times);
            double step = UnitTable.ToSi(EvenTimes.Step($"{Name}, {layout.Times}", times), layout.TimeFactor);
            Find();
            // places that hold no shot have no number
            ShotInfo[] taken = [.. _classes.SelectMany(c => c.Shots).Where(s => s.Number >= 0)];
            return (StatedShape.Of(new StatedAxis(UnitTable.ToSi(times[0], layout.TimeFactor), step, times.Length), layout.Meaning, taken.Length, kind), taken);
        });
    }

    public override IEnumerable<ShotBlock> ReadBlocks()
    {
        int done = 0;
        foreach ((string group, ShotInfo[] shots) in _classes)
        {
            string path = $"{group}/{_layout.Samples}";
            IReadOnlyList<long> dimensions = File.Shape(path).Dimensions;
            int repeats = (int)dimensions[1];
            for (int point = 0; point < dimensions[0]; point++)
            {
                double[] values = File.ReadReals(path, point, 1);
                for (int r = 0; r < repeats; r++)
                {
                    double[] record = values[(r * Shape.Samples)..((r + 1) * Shape.Samples)];
                    if (Taken(path, shots[point * repeats + r], record)) yield return new ShotBlock(done++, [shots[point * repeats + r]], record);
                }
            }
        }
    }

    /// <summary>False for a record of NaN throughout; a record with some NaN is damaged.</summary>
    bool Taken(string path, ShotInfo info, double[] record)
    {
        int bad = record.Count(v => !double.IsFinite(v));
        if (bad == 0) return true;
        return bad == record.Length && record.All(double.IsNaN) ? false
            : throw new DataFaultException($"{Name}, {path}, shot {info.Number.ToString(CultureInfo.InvariantCulture)}", $"{bad} samples that are no finite numbers", "none, or NaN throughout", "record the shot again");
    }

    void Find()
    {
        var pattern = new Regex("^" + Regex.Escape(_layout.Groups).Replace("\\{kind}", "(?<kind>.+?)", StringComparison.Ordinal)
            .Replace("\\{condition}", "(?<condition>.+?)", StringComparison.Ordinal) + "$", RegexOptions.CultureInvariant, TimeSpan.FromSeconds(1));
        foreach (string group in File.Groups("/"))
        {
            Match match = pattern.Match(group);
            if (match.Success) _classes.Add((group, ReadShots(group, match.Groups["kind"].Value, match.Groups["condition"].Value)));
        }
        if (_classes.Count == 0) throw new DataFaultException(Name, $"no group \"{_layout.Groups}\"", "one group a kind and condition", "correct samples.groups in the layout");
    }

    string ConditionOf(string label) => label.Length == 0 ? _layout.Shots.OnlyCondition ?? "off" : _layout.Shots.ConditionNames.GetValueOrDefault(label, label);

    ShotInfo[] ReadShots(string group, string kind, string condition)
    {
        ShotColumns c = _layout.Shots;
        DatasetShape shape = File.Shape($"{group}/{_layout.Samples}");
        if (shape.Dimensions.Count != 3 || shape.Elements != ElementKind.Real)
            throw new DataFaultException($"{Name}, {group}/{_layout.Samples}", $"{shape.Dimensions.Count} dimensions of {shape.Elements}", "[point, repeat, sample] of floating-point numbers", "choose the layout that fits the file");
        int count = (int)(shape.Dimensions[0] * shape.Dimensions[1]);
        double[]? Numbers(string? name) => name is null ? null : File.ReadReals($"{group}/{name}", 0, (int)shape.Dimensions[0]);
        double[]? numbers = Numbers(c.Number), probe = Numbers(c.ProbeMonitor), ablation = Numbers(c.AblationMonitor), detuning = Numbers(c.Detuning);
        int label = Enumerable.Range(0, c.KindLabels.Count).FirstOrDefault(k => c.KindLabels[k] == kind, -1);
        if (label < 0) throw new DataFaultException($"{Name}, {group}", $"kind \"{kind}\"", $"one of {string.Join(", ", c.KindLabels)}", "add the label under [kinds] in the layout");
        return [.. Enumerable.Range(0, count).Select(k => new ShotInfo(numbers is null ? k : double.IsFinite(numbers[k]) ? (long)numbers[k] : -1, (ShotKind)label,
            ConditionOf(condition), probe?[k] ?? double.NaN, ablation?[k] ?? double.NaN, (detuning?[k] ?? double.NaN) * c.DetuningFactor))];
    }
}
