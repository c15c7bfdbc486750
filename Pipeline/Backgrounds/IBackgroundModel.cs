using Pipeline.Apparatus;
using Pipeline.Reduction;

namespace Pipeline.Backgrounds;

/// <summary>A way to tell from the other kinds of shot what stands under the molecules.</summary>
public interface IBackgroundModel
{
    /// <summary>Name in the configuration.</summary>
    string Name { get; }

    /// <summary>The background of a condition, by all its shots.</summary>
    /// <exception cref="DataFaultException">The run lacks the shots that the model needs.</exception>
    IBackgroundFit Fit(BinnedRun run, string condition, Detector detector);
}

/// <summary>A background that is known.</summary>
public interface IBackgroundFit
{
    /// <summary>Signal shots, or some of them, with the background that stands in them.</summary>
    NetSignal Under(ShotGroup signal);
}

/// <summary>What every background model offers by what it must.</summary>
public static class BackgroundModelExtensions
{
    /// <summary>The summed signal of a condition and its background.</summary>
    /// <exception cref="DataFaultException">The run lacks the shots that the model needs.</exception>
    public static NetSignal Subtract(this IBackgroundModel model, BinnedRun run, string condition, Detector detector) =>
        model.Fit(run, condition, detector).Under(run.Find(condition, ShotKind.Signal)!);
}

/// <summary>Every background model. To add one, write its file and add its line.</summary>
public static class BackgroundModels
{
    public static IReadOnlyList<IBackgroundModel> All { get; } = [new SteadyBackground(), new TemplateBackground()];

    /// <summary>The model of this name.</summary>
    public static IBackgroundModel Named(string name) =>
        All.FirstOrDefault(m => m.Name == name) ?? throw new ArgumentOutOfRangeException(nameof(name), name, $"must be one of {string.Join(", ", All.Select(m => m.Name))}");
}
