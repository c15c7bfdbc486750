using Pipeline.Apparatus;
using Pipeline.Backgrounds;
using Pipeline.Reduction;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.Backgrounds;

public class DeadTimeTests
{
    /// <remarks>Measured rates of a non-paralysable detector, m = n/(1 + n tau), and of a paralysable one, m = n exp(-n tau), lower branch;
    /// recomputed by this team.</remarks>
    [Theory]
    [InlineData(1e5, 20e-9, 99_800.399, DeadTimeKind.NonParalysable)]
    [InlineData(1e6, 50e-9, 952_380.952, DeadTimeKind.NonParalysable)]
    [InlineData(1e7, 50e-9, 6_666_666.667, DeadTimeKind.NonParalysable)]
    [InlineData(1e5, 20e-9, 99_800.200, DeadTimeKind.Paralysable)]
    [InlineData(1e6, 50e-9, 951_229.425, DeadTimeKind.Paralysable)]
    [InlineData(1e7, 50e-9, 6_065_306.597, DeadTimeKind.Paralysable)]
    [InlineData(7_148_059.124, 50e-9, 5e6, DeadTimeKind.Paralysable)]
    public void Live_KnownRates_UndoesTheLoss(double rate, double deadTime, double measured, DeadTimeKind kind)
    {
        var axis = new SignalAxis(0, 1e-5, [0, 5, 10]);
        var group = new ShotGroup
        {
            Condition = "off", Kind = ShotKind.Signal, BlockSums = [[0, 0]], BlockShots = [1000], BlockProbeMonitor = [1], BlockAblationMonitor = [1],
            FullSum = [.. Enumerable.Repeat(measured * 1e-5 * 1000, 10)],
        };
        double[] live = DeadTime.Live(group, axis, deadTime, kind);
        // the table gives three decimals
        Assert.Equal(rate, measured / live[1], 1e-8 * rate + 1e-3);
    }

    [Fact]
    public void Live_RateBeyondTheInverse_Refuses()
    {
        var group = new ShotGroup
        {
            Condition = "off", Kind = ShotKind.Signal, BlockSums = [[0]], BlockShots = [1], BlockProbeMonitor = [1], BlockAblationMonitor = [1], FullSum = [300],
        };
        Assert.Contains("dead_time", Assert.Throws<DataFaultException>(() => DeadTime.Live(group, new SignalAxis(0, 1e-5, [0, 1]), 50e-9, DeadTimeKind.NonParalysable)).Fault.Remedy, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData(0.91, 0)]
    [InlineData(0.89, 1)]
    public void Remarks_LossBeyondTenPercent_AreMade(double live, int remarks) =>
        Assert.Equal(remarks, DeadTime.Remarks("off", new SignalAxis(0, 1e-5, [0, 5, 10]), [1, live]).Count());

    [Fact]
    public void NetPerShot_DownwardFluctuation_StaysNegative()
    {
        BinnedRun run = new MadeUpRun().Make(50, 5, new MathNet.Numerics.Random.Xoshiro256StarStar(1, threadSafe: false));
        NetSignal net = BackgroundModels.Named("steady").Subtract(run, "off", new Detector { Kind = DetectorKind.Counting, Efficiency = new(1) });
        double[] perShot = net.NetPerShot();
        Assert.Contains(perShot, x => x < 0);
        // nothing is clipped: the bins add up to the whole
        Assert.Equal((net.Total.Sum() - net.Background.Sum()) / 50, perShot.Sum(), 9);
    }
}
