using System.Globalization;
using Pipeline.Apparatus;
using Pipeline.Hdf5;
using Pipeline.Reduction;

namespace Pipeline.Ingest;

/// <summary>One HDF5 dataset [shot, sample]; blocks are whole rows of chunks.</summary>
sealed class Hdf5MatrixSource : IShotSource
{
    /// <summary>Samples in a block, about; 64 MB as 32-bit integers.</summary>
    const int DefaultBlock = 16_000_000;
    readonly int _blockSamples;
    readonly IHdf5File _file;
    readonly Hdf5MatrixLayout _layout;
    readonly string _name;
    readonly ShotInfo[] _shots;
    readonly DatasetShape _data;

    public Hdf5MatrixSource(string path, Hdf5MatrixLayout layout, DetectorKind kind, int blockSamples = DefaultBlock)
    {
        _blockSamples = blockSamples;
        (_layout, _name, InputFiles) = (layout, Path.GetFileName(path), [path]);
        _file = Hdf5Files.Open(path);
        try
        {
            _data = CheckedShape();
            Shape = ShapeOf(kind);
            _shots = ShotTable.ReadHdf5(_file, layout.Shots).ToShots(_name, layout.Shots, Shape.Shots);
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
        int chunk = _data.RowsPerChunk, rows = Math.Max(1, _blockSamples / Shape.Samples / chunk) * chunk;
        for (int first = 0; first < Shape.Shots; first += rows)
        {
            int count = Math.Min(rows, Shape.Shots - first);
            ShotInfo[] infos = _shots[first..(first + count)];
            yield return _data.Elements == ElementKind.Integer
                ? new ShotBlock(first, infos, _file.ReadIntegers(_layout.Samples, first, count))
                : new ShotBlock(first, infos, Finite(_file.ReadReals(_layout.Samples, first, count), first));
        }
    }

    DatasetShape CheckedShape()
    {
        DatasetShape shape = _file.Shape(_layout.Samples);
        string where = $"{_name}, {_layout.Samples}";
        if (shape.Elements is not (ElementKind.Integer or ElementKind.Real))
            throw new DataFaultException(where, "elements that are no numbers", "integers or floating-point numbers", "name the right dataset in the layout");
        if (shape.Dimensions.Count != 2)
            throw new DataFaultException(where, $"{shape.Dimensions.Count} dimensions", "two, [shot, sample]", "choose the layout that fits the file");
        if (shape.Dimensions.Any(d => d < 1 || d > 100_000_000))
            throw new DataFaultException(where, $"shape [{string.Join(", ", shape.Dimensions)}]", "at least one shot and one sample", "record the run again");
        return shape;
    }

    RecordShape ShapeOf(DetectorKind kind)
    {
        double start = Value(_layout.Start), step = Value(_layout.Step);
        if (!(step > 0)) throw new DataFaultException($"{_name}, sampling interval", $"{step.ToString(CultureInfo.InvariantCulture)} s", "a positive time", "correct the layout or the file");
        return new RecordShape
        {
            Shots = (int)_data.Dimensions[0], Samples = (int)_data.Dimensions[1], TickSeconds = step,
            OriginSeconds = _layout.Meaning == SampleMeaning.Instant ? start - 0.5 * step : start, Kind = kind,
            Scale = Value(_layout.Scale), Offset = Value(_layout.Offset), LowestCode = _layout.LowestCode, HighestCode = _layout.HighestCode,
        };
    }

    double Value(StatedOrStored of) =>
        of.Attribute is { } attribute ? of.Factor * _file.ReadNumberAttribute(_layout.Samples, attribute) : of.Value ?? 0;

    double[] Finite(double[] values, int firstShot)
    {
        int bad = Array.FindIndex(values, v => !double.IsFinite(v));
        if (bad < 0) return values;
        throw new DataFaultException($"{_name}, {_layout.Samples}, shot {firstShot + bad / Shape.Samples}, sample {bad % Shape.Samples}",
            values[bad].ToString(CultureInfo.InvariantCulture), "a finite number", "the record is incomplete: record the shot again");
    }
}
