using MathNet.Numerics.Distributions;
using Pipeline.Apparatus;
using Pipeline.Predictions;
using Pipeline.Reduction;
using Pipeline.Response;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.Predictions;

public class ScanFoldTests
{
    static readonly VelocityGrid Grid = new(20, 300, 2);
    static readonly double[] Readings = [.. Enumerable.Range(0, 40).Select(p => 30e6 + 7e6 * p)];
    // a laser that grows brighter by a fifth while it is scanned
    static readonly double[] Light = [.. Readings.Select((_, p) => 0.9 + 0.005 * p)];
    static readonly SignalAxis Doppler = new(0, 1e-5, [100, 4000], Readings, Light);
    static readonly SignalAxis Map = new(0, 1e-5, [300, 450, 550, 620, 700, 800, 950, 1200, 2000], Readings, Light);

    /// <summary>Two lines, 45 degrees, laser jitter and no spread of transverse speeds; some molecules go dark.</summary>
    static Setup Setup
    {
        get
        {
            Setup plain = TestSetups.OneMetre(new GaussianEmission { Delay = new(3e-4), Width = new(5e-5) }, 4000, 50);
            return plain with
            {
                Species = plain.Species with { Lines = [new(0, 2), new(25e6, 1)] },
                Probe = plain.Probe with { Angle = new(Math.PI / 4), LaserJitter = new(1e6), DetuningSpread = new(1e6), AxisZero = new(3e6) },
            };
        }
    }

    [Theory]
    [InlineData("doppler")]
    [InlineData("map")]
    public void Fold_EventByEvent_EqualsMatrixTimesBinnedList(string mode)
    {
        SignalAxis axis = mode == "map" ? Map : Doppler;
        var random = new Random(5);
        (MoleculeList list, double[] cells) = Drawn(random, 40_000);
        FoldedPrediction folded = new PredictionFold(list, axis, Grid).Fold(Setup);
        double[] matrix = ResponseModes.Named(mode).Build(Setup, "off", axis, Grid).Fold(cells);
        int[] bins = [.. Enumerable.Range(0, axis.Bins).Where(i => folded.Variance[i] > 1000)];
        Assert.True(bins.Length > 20);
        // the speeds are the same in both, only their places in the cells and the times are drawn: chi-square can only be below its ordinary value
        Assert.InRange(bins.Average(i => Math.Pow(folded.Signal[i] - matrix[i], 2) / folded.Variance[i]), 0, 1.3);
        Assert.Equal(matrix.Sum(), folded.Signal.Sum(), 1e-3 * matrix.Sum());
    }

    /// <remarks>Molecules that fill their cells evenly leave no chance: what is left is the interpolation of the table, and four places to a cell
    /// of the matrix.</remarks>
    [Fact]
    public void Fold_EvenlySpreadMolecules_EqualsMatrixClosely()
    {
        const int Each = 50;
        double[] speeds = [.. Enumerable.Range(0, Each * 60).Select(k => 80 + 2 * (k + 0.5) / Each)], cells = new double[Grid.Cells];
        foreach (double v in speeds) cells[(int)((v - 20) / 2)]++;
        double[] folded = new PredictionFold(List(speeds, new double[speeds.Length], 3e-4), Doppler, Grid).Fold(Setup).Signal;
        double[] matrix = new DopplerResponse().Build(Setup, "off", Doppler, Grid).Fold(cells);
        for (int p = 0; p < matrix.Length; p++) Assert.Equal(matrix[p], folded[p], 1e-3 * matrix.Max());
    }

    /// <remarks>At 45 degrees speeds along and across the beam shift the line alike; without a photon limit counts go as 1/vz.</remarks>
    [Fact]
    public void Fold_SpeedAlongTheLaser_ShiftsTheLineByTheWholeVelocity()
    {
        Setup setup = Setup with { Species = Setup.Species with { PhotonLimit = null } };
        double[] across = new PredictionFold(List([100], [5], 0), Doppler, Grid).Fold(setup).Signal;
        double[] along = new PredictionFold(List([105], [0], 0), Doppler, Grid).Fold(setup).Signal;
        for (int p = 0; p < along.Length; p++) Assert.Equal(1, 100 * across[p] / (105 * along[p]), 9);
    }

    [Fact]
    public void Fold_MoleculeAfterTheWindow_LeavesNothing()
    {
        var axis = new SignalAxis(0, 1e-5, [100, 900], Readings);
        // 10 ms and 8 ms
        double[] late = new PredictionFold(List([100], [0], 0), axis, Grid).Fold(Setup).Signal, early = new PredictionFold(List([125], [0], 0), axis, Grid).Fold(Setup).Signal;
        Assert.Equal(0, late.Sum());
        Assert.True(early.Sum() > 0);
    }

    [Fact]
    public void Covariance_OneMolecule_IsTheSquareOfItsCounts()
    {
        var fold = new PredictionFold(List([140], [0], 0), Map, Grid);
        double[] factors = [.. Enumerable.Range(0, Map.Bins).Select(i => 1 + 0.01 * i)], signal = fold.Fold(Setup).Signal;
        int[] groups = [.. Enumerable.Range(0, Map.Bins).Select(i => i < 40 ? -1 : i % 7)];
        double[,] covariance = fold.Covariance(Setup, groups, factors);
        double[] sums = [.. Enumerable.Range(0, 7).Select(g => Enumerable.Range(0, Map.Bins).Where(i => groups[i] == g).Sum(i => factors[i] * signal[i]))];
        for (int a = 0; a < 7; a++)
            for (int b = 0; b < 7; b++) Assert.Equal(sums[a] * sums[b], covariance[a, b], 1e-9 * sums.Max() * sums.Max());
    }

    static (MoleculeList List, double[] Cells) Drawn(Random random, int count)
    {
        double[] zeros = new double[count], speeds = [.. zeros.Select(_ => Math.Clamp(Normal.Sample(random, 140, 25), 30, 290))];
        double[] times = [.. zeros.Select(_ => Normal.Sample(random, 3e-4, 5e-5))], cells = new double[Grid.Cells];
        foreach (double v in speeds) cells[(int)((v - 20) / 2)]++;
        return (new MoleculeList(times, zeros, speeds, zeros, zeros, zeros, zeros, [.. zeros.Select(_ => 1.0)], MoleculeWeighting.Crossings), cells);
    }

    static MoleculeList List(double[] speeds, double[] across, double time)
    {
        double[] zeros = new double[speeds.Length];
        return new MoleculeList([.. zeros.Select(_ => time)], zeros, speeds, zeros, zeros, across, zeros, [.. zeros.Select(_ => 1.0)], MoleculeWeighting.Crossings);
    }
}
