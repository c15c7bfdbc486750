using Xunit.Abstractions;
using Xunit.Sdk;

namespace Pipeline.Tests.Benchmarks;

/// <summary>A measurement of time: found only where ARRIVALS_BENCHMARK=1, so that it neither takes time in other runs nor is counted as skipped.</summary>
/// <remarks>ARRIVALS_BENCHMARK=1 dotnet test -c Release --filter FullyQualifiedName~Benchmarks --logger "console;verbosity=detailed"</remarks>
[AttributeUsage(AttributeTargets.Method)]
[XunitTestCaseDiscoverer("Pipeline.Tests.Benchmarks.BenchmarkDiscoverer", "Pipeline.Tests")]
public sealed class BenchmarkFactAttribute : FactAttribute;

/// <summary>Finds benchmarks where they are asked for.</summary>
public sealed class BenchmarkDiscoverer(IMessageSink messages) : IXunitTestCaseDiscoverer
{
    public IEnumerable<IXunitTestCase> Discover(ITestFrameworkDiscoveryOptions discoveryOptions, ITestMethod testMethod, IAttributeInfo factAttribute) =>
        Environment.GetEnvironmentVariable("ARRIVALS_BENCHMARK") == "1"
            ? [new XunitTestCase(messages, discoveryOptions.MethodDisplayOrDefault(), discoveryOptions.MethodDisplayOptionsOrDefault(), testMethod)]
            : [];
}

/// <summary>Benchmarks run one after the other, with no other test beside them.</summary>
[CollectionDefinition(Name, DisableParallelization = true)]
public sealed class BenchmarkOrder
{
    public const string Name = "benchmarks";
}
