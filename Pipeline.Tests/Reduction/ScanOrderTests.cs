using Pipeline.Apparatus;
using Pipeline.Reduction;

namespace Pipeline.Tests.Reduction;

/// <summary>Points that a scan visits once, or on the way up and on the way down.</summary>
public class ScanOrderTests
{
    static readonly Detector Counting = new() { Kind = DetectorKind.Counting, Efficiency = new(1) };

    /// <summary>Readings 0, 10, 20, 30 MHz and back, one shot each.</summary>
    static ShotInfo[] UpDown(Func<int, int?> point) => [.. Enumerable.Range(0, 8).Select(k => new ShotInfo(100 + k, ShotKind.Signal, "off", 1, 1, 10e6 * Math.Min(k, 7 - k)) { Point = point(k) })];

    [Fact]
    public void Reduce_PassesInOnePoint_LieInTheMiddle()
    {
        ShotGroup[] points = Reduce(UpDown(k => Math.Min(k, 7 - k)), new ReductionSettings { ByPoint = true });
        Assert.Equal(4, points.Length);
        Assert.All(points, p => Assert.Equal((2.0, 0.0), (p.Shots, Math.Round(p.Order, 12))));
        ShotGroup[] byReading = Reduce(UpDown(_ => null), new ReductionSettings { ByPoint = true, ScanStepHz = 1e6 });
        Assert.Equal(points.Select(p => (p.Detuning, p.Shots, p.Order)), byReading.Select(p => (p.Detuning, p.Shots, p.Order)));
    }

    [Fact]
    public void Reduce_PassesApart_HaveTheirOwnPlaces()
    {
        ShotGroup[] points = Reduce(UpDown(k => k), new ReductionSettings { ByPoint = true });
        Assert.Equal([0, 0, 10e6, 10e6, 20e6, 20e6, 30e6, 30e6], points.Select(p => p.Detuning));
        Assert.Equal([-0.5, 0.5], points.Take(2).Select(p => Math.Round(p.Order, 12)));
        Assert.Equal(-2.5 / 7, points[2].Order, 12);
        Assert.Equal(2.5 / 7, points[3].Order, 12);
    }

    /// <summary>A file that holds its shots in another order, and whose first shot is cut: places go by the shots' numbers, from the first that is kept.</summary>
    [Fact]
    public void Reduce_ShotsOutOfOrderAndCut_CountFromTheFirstKept()
    {
        ShotInfo[] infos = [.. UpDown(k => k).Select(s => s.Number == 100 ? s with { Repeated = true } : s).Reverse()];
        ShotGroup[] points = Reduce(infos, new ReductionSettings { ByPoint = true });
        Assert.Equal(7, points.Length);
        Assert.Equal(-0.5, points.Single(p => p.Point == 1).Order, 12);
        Assert.Equal(0, points.Single(p => p.Point == 4).Order, 12);
        Assert.Equal(0.5, points.Single(p => p.Point == 7).Order, 12);
    }

    static ShotGroup[] Reduce(ShotInfo[] infos, ReductionSettings settings)
    {
        var shape = new RecordShape { Shots = infos.Length, Samples = 200, OriginSeconds = -1e-3, TickSeconds = 1e-5, Kind = DetectorKind.Counting };
        int[] codes = [.. Enumerable.Range(0, infos.Length * 200).Select(k => k % 3)];
        return [.. Reducer.Reduce(shape, infos, [new ShotBlock(0, infos, codes)], Counting, settings).Scan("off")];
    }
}
