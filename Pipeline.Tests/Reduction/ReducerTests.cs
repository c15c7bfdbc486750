using Pipeline.Apparatus;
using Pipeline.Reduction;

namespace Pipeline.Tests.Reduction;

public class ReducerTests
{
    static readonly Detector Counting = new() { Kind = DetectorKind.Counting, Efficiency = new(1), ProbeMonitorZero = new(0.1) };

    static RecordShape Shape(int shots, DetectorKind kind = DetectorKind.Counting) =>
        new() { Shots = shots, Samples = 1000, OriginSeconds = -1e-3, TickSeconds = 1e-5, Kind = kind, LowestCode = -100, HighestCode = 100 };

    static ShotInfo Info(int number, double detuning = 0) => new(number, ShotKind.Signal, "off", 1.1, 1, detuning);

    static int[] Noise(int seed, int shots)
    {
        var random = new Random(seed);
        return [.. Enumerable.Range(0, shots * 1000).Select(_ => random.Next(0, 3))];
    }

    [Fact]
    public void Reduce_AnyBlocks_SumsToTheWhole()
    {
        const int Shots = 30;
        ShotInfo[] infos = [.. Enumerable.Range(0, Shots).Select(k => Info(k))];
        int[] codes = Noise(1, Shots);
        BinnedRun one = Reducer.Reduce(Shape(Shots), infos, [new ShotBlock(0, infos, codes)], Counting, new ReductionSettings());
        BinnedRun many = Reducer.Reduce(Shape(Shots), infos, Enumerable.Range(0, 10).Select(b => new ShotBlock(3 * b, infos[(3 * b)..(3 * b + 3)], codes[(3000 * b)..(3000 * b + 3000)])), Counting, new ReductionSettings());
        ShotGroup group = one.Groups.Single();
        Assert.Equal(codes.Sum(c => (double)c), group.BlockSums.Sum(b => b.Sum()));
        Assert.Equal(codes.Sum(c => (double)c), group.FullSum.Sum());
        Assert.Equal(group.BlockSums, many.Groups.Single().BlockSums);
        Assert.Equal(Shots, group.Shots);
        // monitors count from their zero
        Assert.Equal(1.0 * Shots, group.BlockProbeMonitor.Sum(), 9);
    }

    [Fact]
    public void Reduce_BadHousekeeping_IsCutWithItsReason()
    {
        ShotInfo[] infos = [.. Enumerable.Range(0, 10).Select(k => Info(k, k == 3 ? 50e6 : 0))];
        int[] codes = Noise(2, 10);
        codes[5 * 1000 + 20] = 100;
        Array.Fill(codes, 7, 8 * 1000, 1000);
        BinnedRun run = Reducer.Reduce(Shape(10), infos, [new ShotBlock(0, infos, codes)], Counting, new ReductionSettings { UnlockedBeyondHz = 40e6 });
        Assert.Equal([8L], run.Cuts.Single(c => c.Reason == "missing trigger").Numbers);
        Assert.Equal([3L], run.Cuts.Single(c => c.Reason == "probe unlocked").Numbers);
        Assert.Equal([5L], run.Cuts.Single(c => c.Reason == "saturated").Numbers);
        Assert.Equal(7, run.Groups.Single().Shots);
    }

    [Theory]
    [InlineData(40e6, 0)]
    [InlineData(40.000001e6, 1)]
    public void Reduce_DetuningAtTheLimit_IsKeptAndBeyondItCut(double detuning, int cut)
    {
        ShotInfo[] infos = [.. Enumerable.Range(0, 5).Select(k => Info(k, k == 1 ? detuning : 0))];
        BinnedRun run = Reducer.Reduce(Shape(5), infos, [new ShotBlock(0, infos, Noise(3, 5))], Counting, new ReductionSettings { UnlockedBeyondHz = 40e6 });
        Assert.Equal(cut, run.Cuts.Sum(c => c.Numbers.Count));
    }

    [Fact]
    public void Reduce_MonitorFarFromTheOthers_IsCut()
    {
        ShotInfo[] infos = [.. Enumerable.Range(0, 20).Select(k => Info(k) with { ProbeMonitor = k == 7 ? 1.5 : 1 + 0.01 * (k % 5) })];
        BinnedRun run = Reducer.Reduce(Shape(20), infos, [new ShotBlock(0, infos, Noise(6, 20))], Counting, new ReductionSettings { MonitorOutlierBeyond = 8 });
        Assert.Equal([7L], run.Cuts.Single(c => c.Reason == "monitor outlier").Numbers);
        Assert.Empty(Reducer.Reduce(Shape(20), infos, [new ShotBlock(0, infos, Noise(6, 20))], Counting, new ReductionSettings()).Cuts);
    }

    [Theory]
    [InlineData(40, true)]
    [InlineData(1, false)]
    public void Reduce_EmptyCountingRecord_IsAMissingTriggerOnlyWhereCountsWereDue(int countsBefore, bool cut)
    {
        ShotInfo[] infos = [.. Enumerable.Range(0, 6).Select(k => Info(k))];
        int[] codes = new int[6000];
        // 100 samples before the trigger of 1,000: ten times as many in the whole record
        for (int s = 0; s < 5; s++) for (int k = 0; k < countsBefore; k++) codes[s * 1000 + k] = 1;
        BinnedRun run = Reducer.Reduce(Shape(6), infos, [new ShotBlock(0, infos, codes)], Counting, new ReductionSettings());
        Assert.Equal(cut ? 5 : 6, run.Groups.Single().Shots);
        Assert.Equal(cut ? 0 : 1, run.Remarks.Count);
        Assert.Equal(cut ? 1 : 0, run.Cuts.Count);
    }

    [Fact]
    public void Reduce_ScaleAndOffset_GivePhysicalUnits()
    {
        ShotInfo[] infos = [Info(0), Info(1)];
        RecordShape shape = new() { Shots = 2, Samples = 1000, OriginSeconds = -1e-3, TickSeconds = 1e-5, Kind = DetectorKind.Analog, Scale = 0.5, Offset = -1 };
        int[] codes = Noise(4, 2);
        ShotGroup group = Reducer.Reduce(shape, infos, [new ShotBlock(0, infos, codes)], Counting, new ReductionSettings()).Groups.Single();
        // less the mean of the first 90 of the 100 samples before the trigger, shot by shot
        double first = codes.Take(90).Average(), second = codes.Skip(1000).Take(90).Average();
        Assert.Equal(0.5 * (codes.Sum() - 1000 * (first + second)), group.BlockSums.Sum(b => b.Sum()), 9);
        Assert.Equal(0.5 * (codes[10] - first + codes[1010] - second), group.FullSum[10], 12);
    }

    [Fact]
    public void Axis_AnyRecord_CoversItAndHasAnEdgeAtTheTrigger()
    {
        SignalAxis axis = AxisDesign.For(Shape(1), 0.02, 3e-5);
        Assert.Equal((0, 1000), (axis.Edges[0], axis.Edges[^1]));
        Assert.Contains(100, axis.Edges);
        for (int i = 0; i < axis.Bins - 1; i++)
            if (axis.EdgeSeconds(i) >= 0) Assert.True(axis.WidthSeconds(i) >= 3e-5 - 1e-12);
        Assert.Throws<ArgumentOutOfRangeException>(() => new SignalAxis(0, 1e-5, [0, 5, 5]));
    }
}
