using System.Globalization;
using Pipeline.Apparatus;
using Pipeline.Hdf5;
using Pipeline.Reduction;

namespace Pipeline.Ingest;

/// <summary>Photon time stamps, binned on reading; a stamp outside the stated record is a fault.</summary>
sealed class Hdf5StampsSource : Hdf5ShotSource
{
    const int StampsAtOnce = 4_000_000, BlockSamples = 16_000_000;
    readonly Hdf5StampsLayout _layout;
    long _stamps;
    (double Start, double Step)? _ticks;

    public Hdf5StampsSource(string path, Hdf5StampsLayout layout, DetectorKind kind, Hdf5Access? access = null) : base(path, layout, access)
    {
        _layout = layout;
        Begin(() =>
        {
            if (kind != DetectorKind.Counting) throw new DataFaultException(Name, "time stamps for an analog detector", "a counting detector", "correct detector.kind in apparatus.toml");
            ShotInfo[] shots = ShotTable.ReadHdf5(File, path, layout.Shots).ToShots(repeats: true);
            _stamps = File.Shape(layout.Times).Dimensions[0];
            if (File.Shape(layout.ShotIndex).Dimensions[0] != _stamps)
                throw new DataFaultException($"{Name}, {layout.ShotIndex}", $"{File.Shape(layout.ShotIndex).Dimensions[0]} values", $"{_stamps}, one for each time", "the file is damaged: record it again");
            _ticks = WholeTicks(layout, File.Shape(layout.Times).Elements);
            return (StatedShape.Of(layout.Axis, layout.Meaning, shots.Length, kind), shots);
        });
    }

    public override IEnumerable<ShotBlock> ReadBlocks()
    {
        int rows = Math.Clamp(BlockSamples / Shape.Samples, 1, Shape.Shots), first = 0, last = 0;
        int[] codes = Empty(first, rows);
        for (long from = 0; from < _stamps; from += StampsAtOnce)
        {
            int count = (int)Math.Min(StampsAtOnce, _stamps - from);
            double[] times = File.ReadReals(_layout.Times, from, count), index = File.ReadReals(_layout.ShotIndex, from, count);
            for (int k = 0; k < count; k++)
            {
                int shot = last = ShotOf(index[k], last, from + k);
                while (shot >= first + rows)
                {
                    yield return Block(first, rows, codes);
                    first += rows;
                    codes = Empty(first, rows);
                }
                int sample = SampleOf(times[k], from + k);
                codes[(shot - first) * Shape.Samples + sample]++;
            }
        }
        for (; first < Shape.Shots; first += rows, codes = Empty(first, rows)) yield return Block(first, rows, codes);
    }

    int[] Empty(int first, int rows) => new int[Math.Max(0, Math.Min(rows, Shape.Shots - first)) * Shape.Samples];

    ShotBlock Block(int first, int rows, int[] codes) => new(first, ShotsFrom(first, rows), codes);

    int ShotOf(double index, int last, long stamp)
    {
        if (index >= last && index < Shape.Shots && index == Math.Floor(index)) return (int)index;
        throw new DataFaultException($"{Name}, {_layout.ShotIndex}, stamp {stamp.ToString(CultureInfo.InvariantCulture)}", index.ToString(CultureInfo.InvariantCulture),
            $"a position that does not fall, below {Shape.Shots}", "sort the stamps by shot");
    }

    /// <summary>Whole stamps are sorted into whole bins by whole numbers. A time in floating point that is a bin's edge but for its last
    /// digits counts as the edge.</summary>
    int SampleOf(double time, long stamp)
    {
        double place = _ticks is { } ticks ? Math.Floor((time - ticks.Start) / ticks.Step) : Place((time * _layout.TimeFactor - _layout.Axis.Start) / _layout.Axis.Step);
        if (place >= 0 && place < Shape.Samples) return (int)place;
        throw new DataFaultException($"{Name}, {_layout.Times}, stamp {stamp.ToString(CultureInfo.InvariantCulture)}", time.ToString(CultureInfo.InvariantCulture),
            $"a time inside the record, {_layout.Axis.Start:G6} s to {_layout.Axis.Start + Shape.Samples * _layout.Axis.Step:G6} s", "correct start, step and samples in the layout");
    }

    static double Place(double bins) => Math.Abs(bins - Math.Round(bins)) < 1e-9 * Math.Max(1, Math.Abs(bins)) ? Math.Round(bins) : Math.Floor(bins);

    /// <summary>Start and step in ticks of the time tagger, where the stamps are whole and both are a whole number of ticks.</summary>
    static (double Start, double Step)? WholeTicks(Hdf5StampsLayout layout, ElementKind elements)
    {
        double start = layout.Axis.Start / layout.TimeFactor, step = layout.Axis.Step / layout.TimeFactor;
        bool whole = elements == ElementKind.Integer && Math.Abs(start - Math.Round(start)) < 1e-6 && Math.Abs(step - Math.Round(step)) < 1e-6 && Math.Round(step) >= 1;
        return whole ? (Math.Round(start), Math.Round(step)) : null;
    }
}
