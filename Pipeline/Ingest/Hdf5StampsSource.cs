using System.Globalization;
using Pipeline.Apparatus;
using Pipeline.Hdf5;
using Pipeline.Reduction;

namespace Pipeline.Ingest;

/// <summary>Photon time stamps, binned on reading; stamps before and after the record are counted and said.</summary>
sealed class Hdf5StampsSource : IShotSource
{
    const int StampsAtOnce = 4_000_000, BlockSamples = 16_000_000;
    readonly Hdf5StampsLayout _layout;
    readonly IHdf5File _file;
    readonly string _name;
    readonly ShotInfo[] _shots;
    readonly long _stamps;

    public Hdf5StampsSource(string path, Hdf5StampsLayout layout, DetectorKind kind)
    {
        (_layout, _name, InputFiles) = (layout, Path.GetFileName(path), [path]);
        if (kind != DetectorKind.Counting) throw new DataFaultException(_name, "time stamps for an analog detector", "a counting detector", "correct detector.kind in apparatus.toml");
        _file = Hdf5Files.Open(path);
        try
        {
            _shots = ShotTable.ReadHdf5(_file, layout.Shots).ToShots(_name, layout.Shots);
            _stamps = _file.Shape(layout.Times).Dimensions[0];
            if (_file.Shape(layout.ShotIndex).Dimensions[0] != _stamps)
                throw new DataFaultException($"{_name}, {layout.ShotIndex}", $"{_file.Shape(layout.ShotIndex).Dimensions[0]} values", $"{_stamps}, one for each time", "the file is damaged: record it again");
            Shape = StatedShape.Of(layout.Axis, layout.Meaning, _shots.Length, kind);
        }
        catch
        {
            _file.Dispose();
            throw;
        }
    }

    public RecordShape Shape { get; }
    public IReadOnlyList<string> InputFiles { get; }
    public IReadOnlyList<ShotInfo> Shots => _shots;
    public string Reader => _file.Reader;

    public void Dispose() => _file.Dispose();

    public IEnumerable<ShotBlock> ReadBlocks()
    {
        int rows = Math.Clamp(BlockSamples / Shape.Samples, 1, _shots.Length), first = 0, last = 0;
        int[] codes = Empty(first, rows);
        for (long from = 0; from < _stamps; from += StampsAtOnce)
        {
            int count = (int)Math.Min(StampsAtOnce, _stamps - from);
            double[] times = Numbers(_layout.Times, from, count), index = Numbers(_layout.ShotIndex, from, count);
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
        for (; first < _shots.Length; first += rows, codes = Empty(first, rows)) yield return Block(first, rows, codes);
    }

    int[] Empty(int first, int rows) => new int[Math.Max(0, Math.Min(rows, _shots.Length - first)) * Shape.Samples];

    ShotBlock Block(int first, int rows, int[] codes) => new(first, _shots[first..Math.Min(first + rows, _shots.Length)], codes);

    int ShotOf(double index, int last, long stamp)
    {
        if (index >= last && index < _shots.Length && index == Math.Floor(index)) return (int)index;
        throw new DataFaultException($"{_name}, {_layout.ShotIndex}, stamp {stamp.ToString(CultureInfo.InvariantCulture)}", index.ToString(CultureInfo.InvariantCulture),
            $"a position that does not fall, below {_shots.Length}", "sort the stamps by shot");
    }

    int SampleOf(double time, long stamp)
    {
        double place = Math.Floor((time * _layout.TimeFactor - _layout.Axis.Start) / _layout.Axis.Step);
        if (place >= 0 && place < Shape.Samples) return (int)place;
        throw new DataFaultException($"{_name}, {_layout.Times}, stamp {stamp.ToString(CultureInfo.InvariantCulture)}", time.ToString(CultureInfo.InvariantCulture),
            $"a time inside the record, {_layout.Axis.Start:G6} s to {_layout.Axis.Start + Shape.Samples * _layout.Axis.Step:G6} s", "correct start, step and samples in the layout");
    }

    double[] Numbers(string path, long from, int count) => _file.Shape(path).Elements == ElementKind.Integer
        ? Array.ConvertAll(_file.ReadIntegers(path, from, count), v => (double)v) : _file.ReadReals(path, from, count);
}
