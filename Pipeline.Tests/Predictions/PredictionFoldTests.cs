using Pipeline.Apparatus;
using Pipeline.Predictions;
using Pipeline.Reduction;
using Pipeline.Response;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.Predictions;

public class PredictionFoldTests
{
    static readonly VelocityGrid Grid = new(20, 300, 2);

    static Setup Setup => TestSetups.OneMetre(new GaussianEmission { Delay = new(3e-4), Width = new(5e-5) }, 4000, 50);

    [Fact]
    public void Fold_EventByEvent_EqualsMatrixTimesBinnedList()
    {
        var random = new Random(3);
        const int Count = 40_000;
        double[] zeros = new double[Count], speeds = new double[Count], times = new double[Count], cells = new double[Grid.Cells];
        for (int k = 0; k < Count; k++)
        {
            speeds[k] = MathNet.Numerics.Distributions.Normal.Sample(random, 140, 25);
            if (speeds[k] < 40) speeds[k] = 140;
            times[k] = MathNet.Numerics.Distributions.Normal.Sample(random, 3e-4, 5e-5);
            if (speeds[k] < 300) cells[(int)((speeds[k] - 20) / 2)] += 1;
        }
        SignalAxis axis = AxisDesign.For(new RecordShape { Shots = 1, Samples = 3000, OriginSeconds = 0, TickSeconds = 10e-6, Kind = DetectorKind.Counting }, 0.02, 1e-4);
        var list = new MoleculeList(times, zeros, speeds, zeros, zeros, zeros, zeros, [.. Enumerable.Repeat(1.0, Count)], MoleculeWeighting.Crossings);
        FoldedPrediction folded = new PredictionFold(list, axis, Grid).Fold(Setup);
        double[] matrix = new ArrivalResponse().Build(Setup, "off", axis, Grid).Fold(cells);
        double chi = 0;
        int bins = 0;
        for (int i = 0; i < axis.Bins; i++)
        {
            if (folded.Variance[i] < 1000) continue;
            chi += Math.Pow(folded.Signal[i] - matrix[i], 2) / folded.Variance[i];
            bins++;
        }
        Assert.True(bins > 20);
        // the speeds are the same in both, only times within the emission are drawn: chi-square can only be below its ordinary value
        Assert.InRange(chi / bins, 0, 1.5);
        Assert.Equal(matrix.Sum(), folded.Signal.Sum(), 3e-3 * matrix.Sum());
        Assert.Equal(Count, folded.EffectiveSize, 1e-6 * Count);
    }

    /// <remarks>Kish effective size of weights 1 to 5: 225/55 = 4.0909 (Kish 1965; value recomputed by this team).</remarks>
    [Fact]
    public void EffectiveSize_UnequalWeights_IsKish()
    {
        double[] zeros = new double[5];
        var list = new MoleculeList(zeros, zeros, [100, 110, 120, 130, 140], zeros, zeros, zeros, zeros, [1, 2, 3, 4, 5], MoleculeWeighting.Crossings);
        Assert.Equal(4.0909, new PredictionFold(list, new SignalAxis(0, 1e-4, [0, 500]), Grid).Fold(Setup).EffectiveSize, 4);
    }

    [Fact]
    public void Fold_OutsideAcceptance_IsCutAndCounted()
    {
        Setup narrow = Setup with { Beamline = Setup.Beamline with { AcceptanceHalfWidthX = 1e-3 } };
        // 0.2 m/s across at 100 m/s along 1 m: 2 mm
        var list = new MoleculeList([0, 0], [0, 0], [100, 100], [0, 0], [0, 0], [0.05, 0.2], [0, 0], [1, 1], MoleculeWeighting.Crossings);
        FoldedPrediction folded = new PredictionFold(list, new SignalAxis(0, 1e-4, [0, 500]), Grid).Fold(narrow);
        Assert.Equal((1, 1.0), (folded.Outside, folded.Molecules));
        var all = new MoleculeList([0], [0], [100], [0], [0], [0.2], [0], [1], MoleculeWeighting.Crossings);
        Assert.Throws<DataFaultException>(() => new PredictionFold(all, new SignalAxis(0, 1e-4, [0, 500]), Grid).Fold(narrow));
    }

    [Fact]
    public void Fold_SecondPlane_ArrivesAfterTheRestOfTheWay()
    {
        var list = new MoleculeList([2e-3], [0.25], [100], [0], [0], [0], [0], [1], MoleculeWeighting.Crossings);
        double[] signal = new PredictionFold(list, new SignalAxis(0, 1e-4, [.. Enumerable.Range(0, 200)]), Grid).Fold(Setup).Signal;
        // 2 ms + 0.75 m / 100 m/s = 9.5 ms; the light is thin, so all counts fall into the bins around that edge
        Assert.Equal(signal.Sum(), signal[94] + signal[95], 12);
    }
}
