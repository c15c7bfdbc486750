using Pipeline.Apparatus;

namespace Pipeline.Tests.Response;

public class FilteredEmissionTests
{
    public static TheoryData<EmissionProfile, double> Cases => new()
    {
        { new InstantEmission { Delay = new(1e-4) }, 5e-5 },
        { new GaussianEmission { Delay = new(1e-4), Width = new(2e-5) }, 5e-5 },
        { new ExponentialEmission { Delay = new(1e-4), Tail = new(1e-4) }, 5e-5 },
        { new ExponentialEmission { Delay = new(1e-4), Tail = new(5e-5) }, 5e-5 },
        { new ExponentialGaussianEmission { Delay = new(1.2e-4), Width = new(2e-5), Tail = new(4e-5) }, 5e-5 },
        { new GammaEmission { Delay = new(1e-5), Shape = new(2.5), Scale = new(3e-5) }, 5e-5 },
        { new GammaEmission { Delay = new(1e-5), Shape = new(0.6), Scale = new(7e-5) }, 5e-5 },
        { new PulseRecord("pulse.csv", [1e-5, 4e-5, 6e-5, 1e-4, 3e-4], [0, 3, -0.1, 1, 0]).ToEmission(null), 5e-5 },
    };

    /// <summary>The filter obeys tau G' + G = F, G the filtered cumulative; and its mean comes later by tau.</summary>
    [Theory]
    [MemberData(nameof(Cases))]
    public void Of_AnyPulse_ObeysTheFilterEquation(EmissionProfile pulse, double tau)
    {
        EmissionProfile filtered = FilteredEmission.Of(pulse, tau);
        // equal time constants are taken a thousandth apart
        Assert.Equal(pulse.MeanTime + tau, filtered.MeanTime, 2e-3 * tau);
        for (double t = 2.5e-6; t < 1e-3; t += 7e-6)
        {
            const double H = 1e-8;
            double slope = (filtered.CumulativeAt(t + H) - filtered.CumulativeAt(t - H)) / (2 * H);
            Assert.Equal(pulse.CumulativeAt(t), tau * slope + filtered.CumulativeAt(t), 1e-3);
            double integral = (filtered.IntegratedCumulativeAt(t + H) - filtered.IntegratedCumulativeAt(t - H)) / (2 * H);
            Assert.Equal(filtered.CumulativeAt(t), integral, 1e-5);
        }
        Assert.Equal(1, filtered.CumulativeAt(filtered.Support.High), 9);
    }

    [Fact]
    public void Of_NoTimeConstant_IsThePulse()
    {
        var pulse = new GaussianEmission { Width = new(1e-5) };
        Assert.Same(pulse, FilteredEmission.Of(pulse, 0));
    }
}
