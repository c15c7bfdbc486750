using System.Globalization;
using Pipeline.Apparatus;
using Pipeline.Hdf5;
using Pipeline.Quantities;
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

    public Hdf5MatrixSource(string path, Hdf5MatrixLayout layout, DetectorKind kind, Hdf5Access? access = null, int blockSamples = DefaultBlock) : base(path, layout, access)
    {
        (_layout, _blockSamples) = (layout, blockSamples);
        DatasetShape? data = null;
        Begin(() =>
        {
            data = CheckedShape();
            RecordShape shape = ShapeOf(data, kind);
            ShotInfo[] shots = ShotTable.ReadHdf5(File, path, layout.Shots).UpTo(shape.Shots).ToShots(shape.Shots, repeats: true);
            return (shape with { Shots = shots.Length, Unfilled = (int)data.Dimensions[0] - shots.Length }, shots);
        });
        _data = data!;
    }

    public override IEnumerable<ShotBlock> ReadBlocks()
    {
        int chunk = _data.RowsPerChunk, rows = Math.Max(1, _blockSamples / (Shape.Samples * (_layout.Channel is null ? 1 : (int)_data.Dimensions[1])) / chunk) * chunk;
        for (int first = 0; first < Shape.Shots; first += rows)
        {
            int count = Math.Min(rows, Shape.Shots - first);
            ShotInfo[] infos = ShotsFrom(first, count);
            yield return _data.Elements == ElementKind.Integer
                ? new ShotBlock(first, infos, OneChannel(File.ReadIntegers(_layout.Samples, first, count)))
                : new ShotBlock(first, infos, Finite(OneChannel(File.ReadReals(_layout.Samples, first, count)), first));
        }
    }

    /// <summary>[shots * samples] of [shots * channels * samples].</summary>
    T[] OneChannel<T>(T[] rows)
    {
        if (_layout.Channel is not { } channel) return rows;
        int samples = Shape.Samples, channels = (int)_data.Dimensions[1];
        var one = new T[rows.Length / channels];
        for (int k = 0; k < one.Length / samples; k++) rows.AsSpan((k * channels + channel) * samples, samples).CopyTo(one.AsSpan(k * samples));
        return one;
    }

    DatasetShape CheckedShape()
    {
        DatasetShape shape = File.Shape(_layout.Samples);
        string where = $"{Name}, {_layout.Samples}";
        if (shape.Elements is not (ElementKind.Integer or ElementKind.Real))
            throw new DataFaultException(where, "elements that are no numbers", "integers or floating-point numbers", "name the right dataset in the layout");
        int rank = _layout.Channel is null ? 2 : 3;
        if (shape.Dimensions.Count != rank)
            throw new DataFaultException(where, $"{shape.Dimensions.Count} dimensions", rank == 2 ? "two, [shot, sample]" : "three, [shot, channel, sample]",
                shape.Dimensions.Count == 3 ? "set samples.channel in the layout" : "choose the layout that fits the file");
        if (_layout.Channel >= shape.Dimensions[1])
            throw new DataFaultException(where, $"channels 0 to {shape.Dimensions[1] - 1}", $"a channel {_layout.Channel}", "correct samples.channel in the layout");
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
            Shots = Written((int)data.Dimensions[0]), Samples = (int)data.Dimensions[^1], TickSeconds = step,
            OriginSeconds = _layout.Meaning == SampleMeaning.Instant ? start - 0.5 * step : start, Kind = kind,
            Scale = Value(_layout.Scale), Offset = Value(_layout.Offset), LowestCode = _layout.LowestCode, HighestCode = _layout.HighestCode,
        };
    }

    int Written(int places)
    {
        if (_layout.Written is not { } written) return places;
        double count = Value(written);
        return count >= 1 && count <= places && count == Math.Floor(count) ? (int)count
            : throw new DataFaultException($"{Name}, number of shots written", count.ToString(CultureInfo.InvariantCulture), $"a whole number from 1 to {places}, the places in {_layout.Samples}", "correct samples.written in the layout, or the file");
    }

    double Value(StatedOrStored of) =>
        of.Attribute is { } attribute ? UnitTable.ToSi(File.ReadNumberAttribute(_layout.Samples, attribute), of.Factor) : of.Value ?? 0;

    double[] Finite(double[] values, int firstShot)
    {
        int bad = Array.FindIndex(values, v => !double.IsFinite(v));
        if (bad < 0) return values;
        throw new DataFaultException($"{Name}, {_layout.Samples}, shot {firstShot + bad / Shape.Samples}, sample {bad % Shape.Samples}",
            values[bad].ToString(CultureInfo.InvariantCulture), "a finite number", "the record is incomplete: record the shot again");
    }
}
