using System.Globalization;
using Pipeline.Apparatus;
using Pipeline.Hdf5;
using Pipeline.Reduction;

namespace Pipeline.Ingest;

/// <summary>One HDF5 dataset [shot, sample]; blocks are whole rows of chunks.</summary>
sealed class Hdf5MatrixSource : Hdf5ShotSource
{
    /// <summary>Samples in a block, about; 64 MB as 32-bit integers.</summary>
    const int DefaultBlock = 16_000_000;
    readonly int _blockSamples;
    readonly Hdf5MatrixLayout _layout;
    readonly DatasetShape _data;

    public Hdf5MatrixSource(string path, Hdf5MatrixLayout layout, DetectorKind kind, int blockSamples = DefaultBlock) : base(path)
    {
        (_layout, _blockSamples) = (layout, blockSamples);
        DatasetShape? data = null;
        Begin(() =>
        {
            data = CheckedShape();
            RecordShape shape = ShapeOf(data, kind);
            return (shape, ShotTable.ReadHdf5(File, layout.Shots).ToShots(Name, layout.Shots, shape.Shots));
        });
        _data = data!;
    }

    public override IEnumerable<ShotBlock> ReadBlocks()
    {
        int chunk = _data.RowsPerChunk, rows = Math.Max(1, _blockSamples / Shape.Samples / chunk) * chunk;
        for (int first = 0; first < Shape.Shots; first += rows)
        {
            int count = Math.Min(rows, Shape.Shots - first);
            ShotInfo[] infos = ShotsFrom(first, count);
            yield return _data.Elements == ElementKind.Integer
                ? new ShotBlock(first, infos, File.ReadIntegers(_layout.Samples, first, count))
                : new ShotBlock(first, infos, Finite(File.ReadReals(_layout.Samples, first, count), first));
        }
    }

    DatasetShape CheckedShape()
    {
        DatasetShape shape = File.Shape(_layout.Samples);
        string where = $"{Name}, {_layout.Samples}";
        if (shape.Elements is not (ElementKind.Integer or ElementKind.Real))
            throw new DataFaultException(where, "elements that are no numbers", "integers or floating-point numbers", "name the right dataset in the layout");
        if (shape.Dimensions.Count != 2)
            throw new DataFaultException(where, $"{shape.Dimensions.Count} dimensions", "two, [shot, sample]", "choose the layout that fits the file");
        if (shape.Dimensions.Any(d => d < 1 || d > 100_000_000))
            throw new DataFaultException(where, $"shape [{string.Join(", ", shape.Dimensions)}]", "at least one shot and one sample", "record the run again");
        return shape;
    }

    RecordShape ShapeOf(DatasetShape data, DetectorKind kind)
    {
        double start = Value(_layout.Start), step = Value(_layout.Step);
        if (!(step > 0)) throw new DataFaultException($"{Name}, sampling interval", $"{step.ToString(CultureInfo.InvariantCulture)} s", "a positive time", "correct the layout or the file");
        return new RecordShape
        {
            Shots = (int)data.Dimensions[0], Samples = (int)data.Dimensions[1], TickSeconds = step,
            OriginSeconds = _layout.Meaning == SampleMeaning.Instant ? start - 0.5 * step : start, Kind = kind,
            Scale = Value(_layout.Scale), Offset = Value(_layout.Offset), LowestCode = _layout.LowestCode, HighestCode = _layout.HighestCode,
        };
    }

    double Value(StatedOrStored of) =>
        of.Attribute is { } attribute ? of.Factor * File.ReadNumberAttribute(_layout.Samples, attribute) : of.Value ?? 0;

    double[] Finite(double[] values, int firstShot)
    {
        int bad = Array.FindIndex(values, v => !double.IsFinite(v));
        if (bad < 0) return values;
        throw new DataFaultException($"{Name}, {_layout.Samples}, shot {firstShot + bad / Shape.Samples}, sample {bad % Shape.Samples}",
            values[bad].ToString(CultureInfo.InvariantCulture), "a finite number", "the record is incomplete: record the shot again");
    }
}
